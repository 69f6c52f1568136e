# KLU of SuiteSparse, which comes without a CMake package in many distributions.
#
# Defines the targets KLU::KLU and KLU::AMD, and KLU_FOUND. For static linking they bring what KLU itself needs.
include(FindPackageHandleStandardArgs)

find_path(KLU_INCLUDE_DIR klu.h PATH_SUFFIXES suitesparse)
set(KLU_PARTS)
foreach(part klu btf colamd amd suitesparseconfig)
  find_library(KLU_${part}_LIBRARY ${part})
  list(APPEND KLU_PARTS KLU_${part}_LIBRARY)
  mark_as_advanced(KLU_${part}_LIBRARY)
endforeach()
mark_as_advanced(KLU_INCLUDE_DIR)
find_package_handle_standard_args(KLU REQUIRED_VARS ${KLU_PARTS} KLU_INCLUDE_DIR)

if(KLU_FOUND AND NOT TARGET KLU::KLU)
  add_library(KLU::AMD UNKNOWN IMPORTED)
  set_target_properties(KLU::AMD PROPERTIES IMPORTED_LOCATION ${KLU_amd_LIBRARY}
    INTERFACE_INCLUDE_DIRECTORIES ${KLU_INCLUDE_DIR})
  add_library(KLU::KLU UNKNOWN IMPORTED)
  set_target_properties(KLU::KLU PROPERTIES IMPORTED_LOCATION ${KLU_klu_LIBRARY}
    INTERFACE_INCLUDE_DIRECTORIES ${KLU_INCLUDE_DIR})
  if(KLU_klu_LIBRARY MATCHES "\\.a$")
    set_target_properties(KLU::AMD PROPERTIES INTERFACE_LINK_LIBRARIES ${KLU_suitesparseconfig_LIBRARY})
    set_target_properties(KLU::KLU PROPERTIES INTERFACE_LINK_LIBRARIES
      "${KLU_btf_LIBRARY};${KLU_colamd_LIBRARY};KLU::AMD;m")
  endif()
endif()
