# SPDX-License-Identifier: GPL-3.0-or-later
# libstericol: the rooms that compute.  They know neither files nor threads, so whoever uses the library needs GSL and
# nothing else.
set(library_rooms stericol_base stericol_water stericol_numerics stericol_column stericol_region)

foreach(kind IN ITEMS shared static)
  string(TOUPPER ${kind} KIND)
  add_library(libstericol_${kind} ${KIND})
  foreach(room IN LISTS library_rooms)
    target_sources(libstericol_${kind} PRIVATE $<TARGET_OBJECTS:${room}>)
  endforeach()
  set_target_properties(libstericol_${kind} PROPERTIES
    OUTPUT_NAME stericol EXPORT_NAME ${kind} LINKER_LANGUAGE C
    VERSION ${PROJECT_VERSION} SOVERSION ${PROJECT_VERSION_MAJOR})
  target_include_directories(libstericol_${kind} PUBLIC
    $<BUILD_INTERFACE:${CMAKE_SOURCE_DIR}/include> $<INSTALL_INTERFACE:${CMAKE_INSTALL_INCLUDEDIR}>)
  # By name, not by imported target: the package config must not depend on how this build found GSL.
  target_link_libraries(libstericol_${kind} PRIVATE ${GSL_LINK_LIBRARIES} m)
  if(STERICOL_SANITIZE OR STERICOL_COVERAGE)
    target_link_libraries(libstericol_${kind} PRIVATE $<BUILD_INTERFACE:stericol_habits>)
  endif()
  add_library(stericol::${kind} ALIAS libstericol_${kind})
endforeach()

configure_file(${CMAKE_SOURCE_DIR}/src/stericol.pc.in ${CMAKE_BINARY_DIR}/stericol.pc @ONLY)
configure_package_config_file(${CMAKE_SOURCE_DIR}/src/stericol-config.cmake.in ${CMAKE_BINARY_DIR}/stericol-config.cmake
  INSTALL_DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
write_basic_package_version_file(${CMAKE_BINARY_DIR}/stericol-config-version.cmake COMPATIBILITY SameMajorVersion)

install(TARGETS libstericol_shared libstericol_static EXPORT stericol_targets
  LIBRARY DESTINATION ${CMAKE_INSTALL_LIBDIR} ARCHIVE DESTINATION ${CMAKE_INSTALL_LIBDIR})
install(EXPORT stericol_targets NAMESPACE stericol:: DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
install(FILES ${CMAKE_BINARY_DIR}/stericol-config.cmake ${CMAKE_BINARY_DIR}/stericol-config-version.cmake
  DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
install(FILES ${CMAKE_BINARY_DIR}/stericol.pc DESTINATION ${CMAKE_INSTALL_LIBDIR}/pkgconfig)
install(DIRECTORY ${CMAKE_SOURCE_DIR}/include/stericol DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
