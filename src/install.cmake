# What `cmake --install` puts in place: the program, the public headers, the static libraries, and what find_package(rivalfold) reads.
include(CMakePackageConfigHelpers)
set(package_folder ${CMAKE_INSTALL_LIBDIR}/cmake/rivalfold)

install(TARGETS rivalfold RUNTIME DESTINATION ${CMAKE_INSTALL_BINDIR})
foreach(room study data folds theory trial verdict report contest)
  install(TARGETS rivalfold_${room} EXPORT rivalfold ARCHIVE DESTINATION ${CMAKE_INSTALL_LIBDIR})
endforeach()
install(DIRECTORY ${PROJECT_SOURCE_DIR}/include/rivalfold DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})

# How Eigen allocates depends on the compiler's options: without this, user code compiled for wider registers (-march=native) or with
# a sanitizer would free our matrices in another way than they were made, and crash. So everybody aligns for the widest registers.
target_compile_definitions(rivalfold_data PUBLIC EIGEN_MAX_ALIGN_BYTES=64 EIGEN_MAX_STATIC_ALIGN_BYTES=16)

install(EXPORT rivalfold NAMESPACE rivalfold:: FILE rivalfold-targets.cmake DESTINATION ${package_folder})
configure_package_config_file(${CMAKE_CURRENT_LIST_DIR}/rivalfold-config.cmake.in ${PROJECT_BINARY_DIR}/rivalfold-config.cmake
                              INSTALL_DESTINATION ${package_folder})
write_basic_package_version_file(${PROJECT_BINARY_DIR}/rivalfold-config-version.cmake COMPATIBILITY SameMinorVersion)
install(FILES ${PROJECT_BINARY_DIR}/rivalfold-config.cmake ${PROJECT_BINARY_DIR}/rivalfold-config-version.cmake
        DESTINATION ${package_folder})
