using System.Text.Json;
using System.Text.Json.Serialization;
using GainMargin.Numerics;

namespace GainMargin;

/// <summary>
/// Results as versioned JSON, both ways, without loss: numbers keep all their bits, an unlimited frequency is written as
/// <c>null</c> with a flag.
/// </summary>
public static class ResultJson
{
    /// <summary>Version of the schema that <see cref="Write"/> writes.</summary>
    public const int SchemaVersion = 1;

    private const string Schema = "gain-margin/stability-boundary";

    private static readonly JsonSerializerOptions Options = new()
    {
        WriteIndented = true,
        PropertyNamingPolicy = JsonNamingPolicy.CamelCase,
        RespectNullableAnnotations = true,
        RespectRequiredConstructorParameters = true,
        Converters =
        {
            new JsonStringEnumConverter(JsonNamingPolicy.CamelCase),
            new ComplexConverter(), new FrequencyConverter(), new NamedVectorConverter(), new LocusPointConverter(),
        },
    };

    /// <summary>Writes a boundary.</summary>
    /// <param name="utf8">Stream to write to; it is left open.</param>
    /// <param name="boundary">The boundary.</param>
    public static void Write(Stream utf8, StabilityBoundary boundary)
    {
        Guard.NotNull(utf8);
        Guard.NotNull(boundary);
        JsonSerializer.Serialize(utf8, new Envelope(Schema, SchemaVersion, boundary), Options);
    }

    /// <summary>Reads a boundary.</summary>
    /// <param name="utf8">Stream to read from; it is left open.</param>
    /// <exception cref="InvalidDataException">Not a boundary, truncated, or written by a newer version of the library.</exception>
    public static StabilityBoundary ReadBoundary(Stream utf8)
    {
        Guard.NotNull(utf8);
        try
        {
            using var document = JsonDocument.Parse(utf8);
            CheckSchema(document.RootElement);
            return document.RootElement.Deserialize<Envelope>(Options)!.Boundary;
        }
        catch (JsonException failure)
        {
            throw new InvalidDataException($"The file is not a complete stability boundary: {failure.Message}", failure);
        }
    }

    private static void CheckSchema(JsonElement root)
    {
        if (root.ValueKind != JsonValueKind.Object
            || !root.TryGetProperty("schema", out var schema) || schema.ValueKind != JsonValueKind.String || schema.GetString() != Schema
            || !root.TryGetProperty("schemaVersion", out var version) || !version.TryGetInt32(out int number))
        {
            throw new InvalidDataException($"The file is not a stability boundary: its \"schema\" is not \"{Schema}\" with a \"schemaVersion\".");
        }

        if (number != SchemaVersion)
        {
            throw new InvalidDataException(
                Guard.Invariant($"The file has schema version {number}; this library reads version {SchemaVersion}. Use a library of the version that wrote it."));
        }
    }

    private sealed record Envelope(string Schema, int SchemaVersion, StabilityBoundary Boundary);
}
