# Finds libmd (message digests): target LibMd::LibMd.
find_path(LibMd_INCLUDE_DIR sha256.h)
find_library(LibMd_LIBRARY md)
include(FindPackageHandleStandardArgs)
find_package_handle_standard_args(LibMd REQUIRED_VARS LibMd_LIBRARY LibMd_INCLUDE_DIR)
if(LibMd_FOUND AND NOT TARGET LibMd::LibMd)
  add_library(LibMd::LibMd UNKNOWN IMPORTED)
  set_target_properties(LibMd::LibMd PROPERTIES IMPORTED_LOCATION ${LibMd_LIBRARY}
                        INTERFACE_INCLUDE_DIRECTORIES ${LibMd_INCLUDE_DIR})
endif()
mark_as_advanced(LibMd_INCLUDE_DIR LibMd_LIBRARY)
