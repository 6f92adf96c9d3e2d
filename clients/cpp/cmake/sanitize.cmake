# Builds what is made after this with the sanitizers of KINEGATE_SANITIZE. The stubs come before:
# generated code is not what they are for, and so one compilation of it serves every kind of build.
if(KINEGATE_SANITIZE)
  add_compile_options(-fsanitize=${KINEGATE_SANITIZE} -fno-sanitize-recover=all -fno-omit-frame-pointer)
  add_link_options(-fsanitize=${KINEGATE_SANITIZE})
  # Under this macro a map field of protobuf has two members more than in the built library, and a
  # shared_ptr lets go by other functions than in gRPC, which then takes those of the stubs, unseen.
  if(KINEGATE_SANITIZE MATCHES thread)
    add_compile_options(-U__SANITIZE_THREAD__)
  endif()
endif()
