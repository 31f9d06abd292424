# Installs the library into a folder of its own, builds examples/library against it as an outside project would, runs it.
# cmake -Dbuild=... -Dsource=... -Dwork=... -Dcompiler=... -Dflags=... -P library_test.cmake
file(REMOVE_RECURSE ${work})

function(run)  # run(<command>...): stops with everything it said if it fails
  execute_process(COMMAND ${ARGN} RESULT_VARIABLE status OUTPUT_VARIABLE out ERROR_VARIABLE err)
  if(NOT status EQUAL 0)
    message(FATAL_ERROR "status ${status} of: ${ARGN}\n${out}\n${err}")
  endif()
endfunction()

# says(<status> <standard output> <standard error> <command>...)
function(says status out err)
  execute_process(COMMAND ${ARGN} WORKING_DIRECTORY ${work} RESULT_VARIABLE found_status OUTPUT_VARIABLE found_out ERROR_VARIABLE found_err)
  if(NOT found_status STREQUAL status OR NOT found_out STREQUAL out OR NOT found_err STREQUAL err)
    message(FATAL_ERROR "${ARGN}\n--- expected: status ${status}\n${out}${err}\n+++ found: status ${found_status}\n${found_out}${found_err}")
  endif()
endfunction()

run(${CMAKE_COMMAND} --install ${build} --prefix ${work}/prefix)
says(0 "rivalfold 0.1.0\n" "" ${work}/prefix/bin/rivalfold --version)

# Nothing of the build tree, and no library that only our own sources include.
file(GLOB_RECURSE package ${work}/prefix/*/cmake/rivalfold/*.cmake)
if(NOT package)
  message(FATAL_ERROR "no package files under ${work}/prefix")
endif()
foreach(file ${package})
  file(READ ${file} text)
  foreach(unwanted "${build}" "${source}/" Boost nlohmann CLI11 Catch2)
    string(FIND "${text}" "${unwanted}" at)
    if(NOT at EQUAL -1)
      message(FATAL_ERROR "${file} names ${unwanted}")
    endif()
  endforeach()
endforeach()

run(${CMAKE_COMMAND} -S ${source}/examples/library -B ${work}/example -DCMAKE_PREFIX_PATH=${work}/prefix
    -DCMAKE_CXX_COMPILER=${compiler} "-DCMAKE_CXX_FLAGS=${flags}")
run(${CMAKE_COMMAND} --build ${work}/example)

file(READ ${CMAKE_CURRENT_LIST_DIR}/expected/library.txt expected)
says(0 "${expected}" "" ${work}/example/contest ${source}/examples/refits/study.yaml)
says(2 "" "usage: contest STUDY.yaml\n" ${work}/example/contest)
file(WRITE ${work}/wrong.yaml "study: A study without anything else\n")
execute_process(COMMAND ${work}/example/contest wrong.yaml WORKING_DIRECTORY ${work} RESULT_VARIABLE status ERROR_VARIABLE err)
if(NOT status EQUAL 1 OR NOT err MATCHES "^wrong.yaml:1:1: error: a study needs the key \"data\".*\n4 things to put right\n$")
  message(FATAL_ERROR "a faulty study: status ${status}\n${err}")
endif()
file(REMOVE_RECURSE ${work})
