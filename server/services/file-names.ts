import { extname } from 'node:path';
import { fileKinds, type FileMediaType } from '../../shared/schemas/files.ts';

const kindWords: Record<FileMediaType, string> = {
  'application/pdf': 'a PDF',
  'image/png': 'a PNG image',
  'image/jpeg': 'a JPEG image',
};

const longestName = 255;

/** Control characters, and those that turn the direction of writing: "gpj.exe" would read as "exe.jpg". */
const unreadable = /[\u0000-\u001f\u007f-\u009f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff]/;

/** Why a name cannot be kept; undefined when it can. */
export function findNameProblem(name: string): string | undefined {
  if (name.trim() === '') return 'The file has no name; give it one and choose it again';
  if (/[/\\]/.test(name) || name === '.' || name === '..') {
    return 'The file name must not hold a folder (/, \\ or ../); rename the file and choose it again';
  }
  if (unreadable.test(name)) return 'The file name holds characters that cannot be shown; rename the file';
  if (name.length > longestName) {
    return `The file name must be ${longestName} characters or fewer: got ${name.length}`;
  }
  return undefined;
}

function findNamedKind(name: string): FileMediaType | undefined {
  const extension = extname(name).toLowerCase();
  const kinds = Object.entries(fileKinds) as [FileMediaType, readonly string[]][];
  return kinds.find(([, extensions]) => extensions.includes(extension))?.[0];
}

/** What the name says against what the content is; `contentType` is undefined where nothing is recognised. */
export function findKindProblem(name: string, contentType: string | undefined): string | undefined {
  const named = findNamedKind(name);
  if (named === undefined) {
    const extension = extname(name);
    const ending = extension === '' ? 'has no ending' : `ends in ${extension}`;
    return `Files must be PDF, PNG or JPEG (.pdf, .png, .jpg): the name ${ending}`;
  }
  if (contentType === named) return undefined;
  const known = contentType !== undefined && contentType in kindWords;
  const content = known ? kindWords[contentType as FileMediaType] : 'neither a PDF nor a PNG or JPEG image';
  return `The name says that the file is ${kindWords[named]} (${extname(name)}), but its content is ${content}`;
}
