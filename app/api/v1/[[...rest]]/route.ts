import { answerUnknownPath } from '../../../../lib/http/unknown-path.ts';

/** Every address that no other file here answers. */
export {
  answerUnknownPath as DELETE,
  answerUnknownPath as GET,
  answerUnknownPath as PATCH,
  answerUnknownPath as POST,
  answerUnknownPath as PUT,
};
