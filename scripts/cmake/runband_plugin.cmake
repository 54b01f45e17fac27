# runband_add_plugin(<id> SOURCES <file>...): a loadable analysis, runband_<id>.so.
# In the tree it is built into the plugin folder of the build. Out of it, after find_package(runband COMPONENTS sdk), it is built
# into the project's own binary folder ($RUNBAND_PLUGIN_PATH names that to the program), and installed among Runband's own.
function(runband_add_plugin id)
  cmake_parse_arguments(PARSE_ARGV 1 plugin "" "" "SOURCES")
  if(NOT id MATCHES "^[a-z][a-z0-9_]*$")
    message(FATAL_ERROR "runband_add_plugin: \"${id}\" is not in snake_case.")
  endif()
  if(NOT plugin_SOURCES OR plugin_UNPARSED_ARGUMENTS)
    message(FATAL_ERROR "runband_add_plugin(${id}): write runband_add_plugin(${id} SOURCES file.cpp ...).")
  endif()
  add_library(runband_${id} MODULE ${plugin_SOURCES})
  # The language level is part of what must agree with the program.
  set_property(GLOBAL APPEND PROPERTY runband_plugins runband_${id})
  set_target_properties(runband_${id} PROPERTIES PREFIX "" CXX_STANDARD 20 CXX_STANDARD_REQUIRED ON CXX_EXTENSIONS OFF)
  if(TARGET runband_core)
    runband_compile(runband_${id})
    target_link_libraries(runband_${id} PRIVATE runband_core)
    set_target_properties(runband_${id} PROPERTIES LIBRARY_OUTPUT_DIRECTORY ${CMAKE_LIBRARY_OUTPUT_DIRECTORY}/runband)
  else()
    target_link_libraries(runband_${id} PRIVATE runband::core)
  endif()
  install(TARGETS runband_${id} LIBRARY DESTINATION ${CMAKE_INSTALL_LIBDIR}/runband)
endfunction()
