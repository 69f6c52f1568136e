#include "solve/kernels.h"
