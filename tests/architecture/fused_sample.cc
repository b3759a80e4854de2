// Compiled so that it must hold a fused multiply-add: unfused.sh is tried on it and must object.
float fused_sample(float a, float b, float c) {
  return __builtin_fmaf(a, b, c);
}
