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
    ARCHIVE_OUTPUT_DIRECTORY ${CMAKE_BINARY_DIR} LIBRARY_OUTPUT_DIRECTORY ${CMAKE_BINARY_DIR}
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

# The .pc file finds its prefix from where it lies, so that the installed tree can be moved.
if(IS_ABSOLUTE ${CMAKE_INSTALL_LIBDIR} OR IS_ABSOLUTE ${CMAKE_INSTALL_INCLUDEDIR})
  set(pc_prefix ${CMAKE_INSTALL_PREFIX})
  set(pc_libdir ${CMAKE_INSTALL_FULL_LIBDIR})
  set(pc_includedir ${CMAKE_INSTALL_FULL_INCLUDEDIR})
else()
  file(RELATIVE_PATH up /prefix/${CMAKE_INSTALL_LIBDIR}/pkgconfig /prefix)
  set(pc_prefix "\${pcfiledir}/${up}")
  set(pc_libdir "\${prefix}/${CMAKE_INSTALL_LIBDIR}")
  set(pc_includedir "\${prefix}/${CMAKE_INSTALL_INCLUDEDIR}")
endif()
configure_file(${CMAKE_SOURCE_DIR}/src/stericol.pc.in ${CMAKE_BINARY_DIR}/stericol.pc @ONLY)
configure_package_config_file(${CMAKE_SOURCE_DIR}/src/stericol-config.cmake.in ${CMAKE_BINARY_DIR}/stericol-config.cmake
  INSTALL_DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
# Below 1.0 a minor version may change the interface.
write_basic_package_version_file(${CMAKE_BINARY_DIR}/stericol-config-version.cmake COMPATIBILITY SameMinorVersion)

install(TARGETS libstericol_shared libstericol_static EXPORT stericol_targets
  LIBRARY DESTINATION ${CMAKE_INSTALL_LIBDIR} ARCHIVE DESTINATION ${CMAKE_INSTALL_LIBDIR})
install(EXPORT stericol_targets NAMESPACE stericol:: DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
install(FILES ${CMAKE_BINARY_DIR}/stericol-config.cmake ${CMAKE_BINARY_DIR}/stericol-config-version.cmake
  DESTINATION ${CMAKE_INSTALL_LIBDIR}/cmake/stericol)
install(FILES ${CMAKE_BINARY_DIR}/stericol.pc DESTINATION ${CMAKE_INSTALL_LIBDIR}/pkgconfig)
install(DIRECTORY ${CMAKE_SOURCE_DIR}/include/stericol DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
