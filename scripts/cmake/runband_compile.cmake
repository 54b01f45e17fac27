# How every target of this project is compiled: warnings, sanitizers, instruction set.
include(CheckCXXSourceRuns)

find_program(RUNBAND_CCACHE ccache)
if(RUNBAND_CCACHE AND NOT CMAKE_CXX_COMPILER_LAUNCHER)
  set(CMAKE_CXX_COMPILER_LAUNCHER ${RUNBAND_CCACHE})
endif()
find_program(RUNBAND_MOLD mold)

# The instruction set is a property of the whole build (Eigen's inline code must agree across the program and its plugins).
set(RUNBAND_ARCH "auto" CACHE STRING "Value for -march; auto takes x86-64-v3 where this machine runs it, empty leaves the compiler's default")
set(runband_arch_flag "")
if(RUNBAND_ARCH STREQUAL "auto")
  set(CMAKE_REQUIRED_FLAGS "-march=x86-64-v3 -O2")
  check_cxx_source_runs("
    #include <immintrin.h>
    int main(int argc, char**) { __m256d a = _mm256_set1_pd(argc); a = _mm256_fmadd_pd(a, a, a);
      return _mm256_cvtsd_f64(a) == 0.0 ? 1 : !__builtin_cpu_supports(\"avx2\"); }" RUNBAND_HAS_V3)
  unset(CMAKE_REQUIRED_FLAGS)
  if(RUNBAND_HAS_V3)
    set(runband_arch_flag -march=x86-64-v3)
  endif()
elseif(RUNBAND_ARCH)
  set(runband_arch_flag -march=${RUNBAND_ARCH})
endif()

# runband_compile(<target>): our own code compiles under these flags, without a warning.
function(runband_compile target)
  # -Wrestrict: false alarms of gcc 12 on std::string (gcc bug 105651).
  if(CMAKE_CXX_COMPILER_ID STREQUAL "GNU")
    target_compile_options(${target} PRIVATE -Wno-restrict)
  endif()
  target_compile_options(${target} PRIVATE -Wall -Wextra -Wshadow -Wconversion -Werror=return-type)
  if(RUNBAND_MOLD AND CMAKE_CXX_COMPILER_ID STREQUAL "GNU")
    target_link_options(${target} PRIVATE -fuse-ld=mold)
  endif()
  if(RUNBAND_SANITIZE)
    target_compile_options(${target} PRIVATE -fsanitize=address,undefined -fno-sanitize-recover=undefined -fno-omit-frame-pointer)
    target_link_options(${target} PRIVATE -fsanitize=address,undefined)
  endif()
endfunction()
