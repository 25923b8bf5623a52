import type { Controller } from './controllers';

export interface Term {
  /** the gain's name in the controller's data */
  readonly gain: string;
  /** one plain sentence */
  readonly does: string;
}

const term = (gain: string, does: string): Term => ({ gain, does });

/**
 * What each term of a controller does to the body, in plain words, for a body that topples or rights itself.
 *
 * The array's torque is minus h cos(tilt) times the tilt rate, so a law for tilt acts one derivative higher
 * than it reads: I h Kd s^2 + h Kp s + h Ki stand beside I s^2, d s and -k.
 */
export function explainTerms(controller: Controller, topples: boolean): readonly Term[] {
  switch (controller.kind) {
    case 'pidTilt':
      return [
        term(
          'kp',
          'P acts as damping: tilt in proportion to lean gives a torque in proportion to lean rate.',
        ),
        term(
          'ki',
          topples
            ? 'I acts as stiffness: it holds the body up once momentum times I exceeds the toppling stiffness.'
            : 'I acts as stiffness: it adds to the righting stiffness and shortens the roll period.',
        ),
        term('kd', 'D acts as inertia: the body answers as if it were heavier, and knocks move it less.'),
      ];
    case 'pidTiltRate':
      return [
        term(
          'kp',
          topples
            ? 'P acts as stiffness: it must exceed the toppling stiffness divided by the momentum.'
            : 'P acts as stiffness: it adds to the righting stiffness.',
        ),
        term('ki', 'I pushes back against a lean that stays; the tilt it takes is not given back.'),
        term('kd', 'D acts as damping: torque in proportion to lean rate.'),
      ];
    case 'feedback':
    case 'planned':
      return [
        ...(controller.kind === 'planned'
          ? [
              term(
                'plan',
                'The plan moves the gimbal before the lean shows; the terms below act on what differs.',
              ),
            ]
          : []),
        term('lean', 'Acts as stiffness: torque against the lean.'),
        term('leanRate', 'Acts as damping: torque against the lean rate.'),
        term(
          'tilt',
          topples
            ? 'Re-centres the gimbal: it tilts further for a moment so that the body leans back and gravity returns the tilt.'
            : 'Re-centres the gimbal: it draws the tilt back to rest and leaves slow roll to the water.',
        ),
        term('tiltRate', 'Smooths the command: a share of the last tilt rate is kept.'),
        term('trim', 'Finds the balance point: a tilt that stays to one side shifts the lean it aims for.'),
      ];
    case 'passive':
      return [
        term(
          'none',
          topples
            ? 'Nothing drives the gimbal: it holds only if the gimbal is top-heavy and the wheel fast enough, and friction lets it drift.'
            : 'Nothing drives the gimbal: roll rate turns it, and its damper takes the energy of the roll out.',
        ),
      ];
    case 'reactionWheel':
      return [
        term(
          'lean',
          'Acts as stiffness: the motor speeds the wheel up towards the lean and the body is pushed back.',
        ),
        term('leanRate', 'Acts as damping.'),
        term(
          'speed',
          'Brings the wheel back to rest: it lets the body lean a little so that gravity slows the wheel.',
        ),
      ];
  }
}
