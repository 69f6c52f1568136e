#include "parts/kernels.h"
