using System.Numerics;
using System.Text.Json;
using System.Text.Json.Serialization;

namespace GainMargin;

/// <summary>A complex number as <c>[re, im]</c>.</summary>
internal sealed class ComplexConverter : JsonConverter<Complex>
{
    public override Complex Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options)
    {
        double[] parts = JsonSerializer.Deserialize<double[]>(ref reader, options) ?? [];
        return parts.Length == 2 ? new Complex(parts[0], parts[1]) : throw new JsonException("A complex number is [re, im].");
    }

    public override void Write(Utf8JsonWriter writer, Complex value, JsonSerializerOptions options)
    {
        writer.WriteStartArray();
        writer.WriteNumberValue(value.Real);
        writer.WriteNumberValue(value.Imaginary);
        writer.WriteEndArray();
    }
}

/// <summary>A frequency as <c>{ "radians": ω, "isUnlimited": false }</c>.</summary>
internal sealed class FrequencyConverter : JsonConverter<Frequency>
{
    private sealed record Dto(double? Radians, bool IsUnlimited);

    public override Frequency Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options)
    {
        var dto = JsonSerializer.Deserialize<Dto>(ref reader, options);
        return dto switch
        {
            { IsUnlimited: true, Radians: null } => Frequency.Unlimited,
            { IsUnlimited: false, Radians: { } radians } when radians >= 0 && double.IsFinite(radians) => Frequency.FromRadians(radians),
            _ => throw new JsonException("A frequency is a number that is not negative, or null with \"isUnlimited\"."),
        };
    }

    public override void Write(Utf8JsonWriter writer, Frequency value, JsonSerializerOptions options)
        => JsonSerializer.Serialize(writer, new Dto(value.IsUnlimited ? null : value.Radians, value.IsUnlimited), options);
}

/// <summary>A named vector as names and values of equal length.</summary>
internal sealed class NamedVectorConverter : JsonConverter<NamedVector>
{
    private sealed record Dto(string[] Dofs, Complex[] Values);

    public override NamedVector Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options)
    {
        var dto = JsonSerializer.Deserialize<Dto>(ref reader, options);
        if (dto is null || dto.Dofs.Length != dto.Values.Length)
        {
            throw new JsonException("A vector has as many names as values.");
        }

        try
        {
            return new NamedVector(DofNames.Of(dto.Dofs), [.. dto.Values]);
        }
        catch (ArgumentException failure)
        {
            throw new JsonException(failure.Message, failure);
        }
    }

    public override void Write(Utf8JsonWriter writer, NamedVector value, JsonSerializerOptions options)
        => JsonSerializer.Serialize(writer, new Dto([.. value.Dofs], [.. value.Values]), options);
}

/// <summary>A point of a locus as <c>[gain, re, im]</c>: there are many.</summary>
internal sealed class LocusPointConverter : JsonConverter<LocusPoint>
{
    public override LocusPoint Read(ref Utf8JsonReader reader, Type typeToConvert, JsonSerializerOptions options)
    {
        double[] parts = JsonSerializer.Deserialize<double[]>(ref reader, options) ?? [];
        return parts.Length == 3 ? new LocusPoint(parts[0], new Complex(parts[1], parts[2])) : throw new JsonException("A point of a locus is [gain, re, im].");
    }

    public override void Write(Utf8JsonWriter writer, LocusPoint value, JsonSerializerOptions options)
        => writer.WriteRawValue(JsonSerializer.Serialize(new[] { value.Gain, value.Root.Real, value.Root.Imaginary }));
}
