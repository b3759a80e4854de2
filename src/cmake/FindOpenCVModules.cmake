# Imported targets for single OpenCV modules.
#
# Debian ships OpenCV's own package configuration only with libopencv-dev, which pulls in every
# module and some 140 packages. Stillfield uses three modules, so it finds just those:
# OpenCVModules::core, ::imgproc, ::imgcodecs. Headers count as system headers.
find_path(OpenCVModules_INCLUDE_DIR opencv2/core.hpp PATH_SUFFIXES opencv4)
set(OpenCVModules_REQUIRED OpenCVModules_INCLUDE_DIR)
foreach(MODULE IN LISTS OpenCVModules_FIND_COMPONENTS)
  find_library(OpenCVModules_${MODULE}_LIBRARY opencv_${MODULE})
  list(APPEND OpenCVModules_REQUIRED OpenCVModules_${MODULE}_LIBRARY)
endforeach()

if(OpenCVModules_INCLUDE_DIR)
  file(STRINGS ${OpenCVModules_INCLUDE_DIR}/opencv2/core/version.hpp VERSION_LINES
       REGEX "#define CV_VERSION_(MAJOR|MINOR|REVISION) ")
  string(REGEX REPLACE "[^0-9;]" "" OpenCVModules_VERSION "${VERSION_LINES}")
  string(REPLACE ";" "." OpenCVModules_VERSION "${OpenCVModules_VERSION}")
endif()

include(FindPackageHandleStandardArgs)
find_package_handle_standard_args(OpenCVModules REQUIRED_VARS ${OpenCVModules_REQUIRED}
                                  VERSION_VAR OpenCVModules_VERSION)

if(OpenCVModules_FOUND)
  foreach(MODULE IN LISTS OpenCVModules_FIND_COMPONENTS)
    if(NOT TARGET OpenCVModules::${MODULE})
      add_library(OpenCVModules::${MODULE} UNKNOWN IMPORTED)
      set_target_properties(OpenCVModules::${MODULE} PROPERTIES
        IMPORTED_LOCATION ${OpenCVModules_${MODULE}_LIBRARY}
        INTERFACE_INCLUDE_DIRECTORIES ${OpenCVModules_INCLUDE_DIR})
    endif()
  endforeach()
endif()
