# Makes the stubs of the protos while building, with Debian's protoc and its gRPC plugin, into the
# library kinegate_stubs. The error details of google/rpc are made too: Debian has none of them.
get_filename_component(kinegate_protos "${CMAKE_CURRENT_LIST_DIR}/../../../proto" ABSOLUTE)
set(kinegate_stubs_dir ${CMAKE_CURRENT_BINARY_DIR}/stubs)
file(MAKE_DIRECTORY ${kinegate_stubs_dir})
file(GLOB kinegate_proto_files CONFIGURE_DEPENDS RELATIVE ${kinegate_protos}
  ${kinegate_protos}/kinegate/v1/*.proto ${kinegate_protos}/google/rpc/*.proto)
find_program(KINEGATE_GRPC_PLUGIN grpc_cpp_plugin REQUIRED)

set(kinegate_stub_sources)
foreach(proto IN LISTS kinegate_proto_files)
  string(REGEX REPLACE "\\.proto$" "" base ${proto})
  set(made ${kinegate_stubs_dir}/${base}.pb.cc ${kinegate_stubs_dir}/${base}.pb.h)
  set(plugin)
  file(STRINGS ${kinegate_protos}/${proto} services REGEX "^service ")
  if(services)
    list(APPEND made ${kinegate_stubs_dir}/${base}.grpc.pb.cc ${kinegate_stubs_dir}/${base}.grpc.pb.h)
    set(plugin --grpc_out=${kinegate_stubs_dir} --plugin=protoc-gen-grpc=${KINEGATE_GRPC_PLUGIN})
  endif()
  add_custom_command(
    OUTPUT ${made}
    COMMAND protobuf::protoc --proto_path=${kinegate_protos} --cpp_out=${kinegate_stubs_dir} ${plugin} ${proto}
    DEPENDS ${kinegate_protos}/${proto}
    VERBATIM)
  list(APPEND kinegate_stub_sources ${made})
endforeach()

add_library(kinegate_stubs STATIC ${kinegate_stub_sources})
target_include_directories(kinegate_stubs SYSTEM PUBLIC
  $<BUILD_INTERFACE:${kinegate_stubs_dir}>
  $<INSTALL_INTERFACE:${CMAKE_INSTALL_INCLUDEDIR}>
)
target_link_libraries(kinegate_stubs PUBLIC gRPC::grpc++ protobuf::libprotobuf)
