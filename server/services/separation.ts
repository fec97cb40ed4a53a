import { clash, type Hands, type SeparatedDuty } from '../../shared/access/separation'
import { DomainError } from '../domainError'

/**
 * @param personId who is about to take the duty.
 * @throws {DomainError} `separation-of-duties`, naming the earlier duty that lies in the same hand.
 */
export function requireSeparation<Duty extends SeparatedDuty>(duty: Duty, personId: string, hands: Hands<Duty>): void {
  const earlier = clash(duty, personId, hands)
  if (earlier) throw new DomainError('separation-of-duties', [{ code: 'same-hand', params: { duty, earlier } }])
}
