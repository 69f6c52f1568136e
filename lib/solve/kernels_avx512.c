#if defined(__AVX512F__)
#include "solve/kernels.h"
#endif
