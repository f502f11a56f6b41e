"""The OpenAPI document: what each operation says of itself, the shared components, and the executed examples."""
