/** Size of a file as it is sent; a compressed one may hold far more. */
export const LARGEST_FILE_BYTES = 512 * 1024 ** 2;
export const LARGEST_FILE_WORDS = "512 MB";
