-- Floating-point arrays do not compress; stored as they are, they are written and read without trying.
ALTER TABLE "result_arrays" ALTER COLUMN "bytes" SET STORAGE EXTERNAL;
