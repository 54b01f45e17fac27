# What `cmake --install` puts where:
#   bin/runband                   the program (viewer/CMakeLists.txt makes it)
#   lib/librunband.so             core
#   lib/runband/                  plugins (runband_plugin.cmake)
#   include/runband/core/...      public headers, reached as #include "core/base/error.h"
#   lib/cmake/runband/            find_package(runband COMPONENTS sdk)
#   share/runband/                standards, demo and tables; found beside the library
#   share/runband/sdk/            new_plugin, and what it copies
#   share/doc/runband/            README, licence
include(CMakePackageConfigHelpers)

install(TARGETS runband_core EXPORT runbandTargets LIBRARY DESTINATION ${CMAKE_INSTALL_LIBDIR})
if(TARGET runband)
  install(TARGETS runband RUNTIME DESTINATION ${CMAKE_INSTALL_BINDIR})
endif()

# Public is a header that shows nothing but the standard library, Eigen and other public headers.
file(GLOB runband_headers RELATIVE ${PROJECT_SOURCE_DIR} CONFIGURE_DEPENDS ${PROJECT_SOURCE_DIR}/core/*/*.h)
foreach(header ${runband_headers})
  file(STRINGS ${PROJECT_SOURCE_DIR}/${header} foreign REGEX "#include [<\"](CGAL|boost|toml|nlohmann|fftw|tbb|oneapi)" LIMIT_COUNT 1)
  if(NOT foreign)
    cmake_path(GET header PARENT_PATH folder)
    install(FILES ${PROJECT_SOURCE_DIR}/${header} DESTINATION ${CMAKE_INSTALL_INCLUDEDIR}/runband/${folder})
  endif()
endforeach()

set(runband_package_dir ${CMAKE_INSTALL_LIBDIR}/cmake/runband)
install(EXPORT runbandTargets NAMESPACE runband:: DESTINATION ${runband_package_dir})
configure_package_config_file(${PROJECT_SOURCE_DIR}/scripts/cmake/runbandConfig.cmake.in
  ${PROJECT_BINARY_DIR}/runbandConfig.cmake INSTALL_DESTINATION ${runband_package_dir})
write_basic_package_version_file(${PROJECT_BINARY_DIR}/runbandConfigVersion.cmake COMPATIBILITY SameMinorVersion)
install(FILES ${PROJECT_BINARY_DIR}/runbandConfig.cmake ${PROJECT_BINARY_DIR}/runbandConfigVersion.cmake
  DESTINATION ${runband_package_dir})
install(FILES ${PROJECT_SOURCE_DIR}/scripts/cmake/runband_plugin.cmake DESTINATION ${runband_package_dir})

install(DIRECTORY ${PROJECT_SOURCE_DIR}/data/ DESTINATION ${CMAKE_INSTALL_DATADIR}/runband)
install(PROGRAMS ${PROJECT_SOURCE_DIR}/scripts/new_plugin DESTINATION ${CMAKE_INSTALL_DATADIR}/runband/sdk)
install(DIRECTORY ${PROJECT_SOURCE_DIR}/scripts/plugin DESTINATION ${CMAKE_INSTALL_DATADIR}/runband/sdk)
install(FILES ${PROJECT_SOURCE_DIR}/plugins/README.md DESTINATION ${CMAKE_INSTALL_DOCDIR}/plugins)
install(FILES ${PROJECT_SOURCE_DIR}/README.md ${PROJECT_SOURCE_DIR}/LICENSE DESTINATION ${CMAKE_INSTALL_DOCDIR})
