import { expect, it } from 'vitest'
import { inWords } from '../../../app/utils/in-words'

it('names fields as the rows of the table do and leaves other words alone', () => {
  expect(inWords('bath.0: broadens; acousticBroadeningMeVPerK = 0.1 adds to it (iPad, modes.2)')).toBe(
    'bath term 1: broadens; acoustic broadening = 0.1 adds to it (iPad, mode 3)',
  )
})
