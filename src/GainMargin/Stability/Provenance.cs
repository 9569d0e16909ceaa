namespace GainMargin;

/// <summary>Where a result comes from, so that two results can be compared knowing what differs.</summary>
/// <param name="LibraryVersion">Version of this library.</param>
/// <param name="Method">Name of the finder.</param>
/// <param name="InputHash">SHA-256 of structure, law, path and range, bit for bit.</param>
/// <param name="OptionsHash">SHA-256 of the options.</param>
/// <param name="Backend">Linear algebra that did the work.</param>
/// <param name="Runtime">Runtime and processor architecture.</param>
public sealed record Provenance(string LibraryVersion, string Method, string InputHash, string OptionsHash, string Backend, string Runtime);
