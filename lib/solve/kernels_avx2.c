#if defined(__AVX2__)
#include "solve/kernels.h"
#endif
